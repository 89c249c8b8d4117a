using System.Diagnostics;
using System.Globalization;
using System.Text;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>The open command as a process: how it ends, and what a kill leaves behind.</summary>
[Collection(SampleRuns.Collection)]
public sealed class OpenProcessTests : IDisposable
{
    private readonly TempFolder folder = new("opened");
    private readonly HttpClient client = new(new SocketsHttpHandler { AllowAutoRedirect = false, UseProxy = false });

    public void Dispose()
    {
        client.Dispose();
        folder.Dispose();
    }

    [LinuxFact]
    public async Task An_interrupt_ends_it_with_0_though_a_page_is_open_and_nothing_is_written()
    {
        string device = folder.Write("device.toml", SmallDevice.Text);
        using Process process = Command.Start(["open", device, "--no-browser"]);
        Uri address = new((await process.StandardOutput.ReadLineAsync())!);
        Assert.Equal("127.0.0.1", address.Host);
        using HttpResponseMessage page = await client.GetAsync(new Uri(address, "events?page=1&wiring=bar"), HttpCompletionOption.ResponseHeadersRead);
        await Post(new(address, "edit"), Edit(7));
        using (Process kill = Process.Start("kill", ["-INT", process.Id.ToString(CultureInfo.InvariantCulture)]))
        {
            await kill.WaitForExitAsync();
        }

        CommandResult result = Command.Finish(process);
        Assert.Equal((0, ""), (result.Exit, result.Out));
        Assert.Equal(["device.toml"], folder.Files);
        Assert.Equal(SmallDevice.Text, await File.ReadAllTextAsync(device));
    }

    /// <summary>
    /// Kills the program while it saves one text after the other: the file holds the text of the last save that was answered, or that of the one after it, whole. A temporary
    /// file may be left; the next save is not hindered. FIELDSOLVE_KILLS sets the number of moments.
    /// </summary>
    [LinuxFact]
    public async Task A_kill_while_saving_leaves_the_old_or_the_new_file()
    {
        int kills = int.TryParse(Environment.GetEnvironmentVariable("FIELDSOLVE_KILLS"), NumberStyles.None, CultureInfo.InvariantCulture, out int n) ? n : 3;
        var random = new Random(9);
        string device = folder.Write("device.toml", SmallDevice.Text);
        int value = 1;
        for (int k = 0; k < kills; k++)
        {
            using Process process = Command.Start(["open", device, "--no-browser", "--quiet"]);
            Uri address = new((await process.StandardOutput.ReadLineAsync())!);
            int saves = random.Next(1, 6), saved = value;
            for (int s = 0; s < saves; s++)
            {
                Assert.True(await Post(new(address, "edit"), Edit(++value)));
                if (s < saves - 1)
                {
                    Assert.True(await Post(new(address, "save"), "{}"));
                    saved = value;
                }
            }

            // A save takes some milliseconds, most of them for the disk.
            Task<bool> last = Post(new(address, "save"), "{}");
            long until = Stopwatch.GetTimestamp() + (long)(random.NextDouble() * 0.01 * Stopwatch.Frequency);
            while (Stopwatch.GetTimestamp() < until)
            {
                Thread.Yield();
            }

            process.Kill();
            await process.WaitForExitAsync();
            bool answered = await last;
            string left = await File.ReadAllTextAsync(device);
            Assert.Contains(left, answered ? [Text(value)] : (string[])[Text(saved), Text(value)]);
            Assert.All(folder.Files, f => Assert.True(f == "device.toml" || (f.StartsWith(".device.toml.", StringComparison.Ordinal) && f.EndsWith(".part", StringComparison.Ordinal)), f));
            value = left == Text(value) ? value : saved;
        }
    }

    private static string Edit(int a) => string.Create(CultureInfo.InvariantCulture, $$"""{"ops":[{"op":"set","path":"law.a","value":"{{a}} mS"}]}""");

    private static string Text(int a) => SmallDevice.Text.Replace("a = \"1 mS\"", string.Create(CultureInfo.InvariantCulture, $"a = \"{a} mS\""), StringComparison.Ordinal);

    // False when the program is gone before it answers.
    private async Task<bool> Post(Uri to, string json)
    {
        using HttpRequestMessage request = new(HttpMethod.Post, to) { Content = new StringContent(json, Encoding.UTF8, "application/json") };
        request.Headers.Add("Origin", to.GetLeftPart(UriPartial.Authority));
        try
        {
            using HttpResponseMessage response = await client.SendAsync(request);
            return response.IsSuccessStatusCode;
        }
        catch (HttpRequestException)
        {
            return false;
        }
    }
}
