using System.Net;
using System.Net.Sockets;
using System.Text;
using System.Text.Json;
using FieldSolve.Cli.Open;
using FieldSolve.Sessions;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>The server of the layout page: who may ask, and what it hands out.</summary>
public sealed class OpenServerTests : IAsyncLifetime, IDisposable
{
    private readonly TempFolder folder = new("open");
    private readonly HttpClient client = new(new SocketsHttpHandler { AllowAutoRedirect = false, UseProxy = false });
    private EditSession session = null!;
    private OpenServer server = null!;

    private Uri Address => new(server.Address);

    public async Task InitializeAsync()
    {
        session = EditSession.Open(folder.Write("device.toml", SmallDevice.Text)).Session!;
        folder.Write("secret.txt", "not to be read");
        server = await OpenServer.Start(session, new OpenOptions { Grace = TimeSpan.FromMilliseconds(100) });
    }

    public async Task DisposeAsync() => await server.DisposeAsync();

    public void Dispose()
    {
        client.Dispose();
        folder.Dispose();
    }

    private async Task<(HttpStatusCode Status, string Text, HttpResponseMessage Response)> Ask(string path, string? json = null, Action<HttpRequestMessage>? change = null)
    {
        using HttpRequestMessage request = new(json is null ? HttpMethod.Get : HttpMethod.Post, new Uri(Address, path));
        if (json is not null)
        {
            request.Content = new StringContent(json, Encoding.UTF8, "application/json");
            request.Headers.Add("Origin", Address.GetLeftPart(UriPartial.Authority));
        }

        change?.Invoke(request);
        HttpResponseMessage response = await client.SendAsync(request);
        return (response.StatusCode, await response.Content.ReadAsStringAsync(), response);
    }

    [Fact]
    public async Task The_page_comes_with_a_policy_that_allows_its_own_parts_alone()
    {
        Assert.Equal("127.0.0.1", Address.Host);
        foreach ((string path, string type) in new[] { ("", "text/html"), ("page.js", "text/javascript"), ("page.css", "text/css") })
        {
            (HttpStatusCode status, _, HttpResponseMessage response) = await Ask(path);
            Assert.Equal(HttpStatusCode.OK, status);
            Assert.Equal(type, response.Content.Headers.ContentType!.MediaType);
            string policy = Assert.Single(response.Headers.GetValues("Content-Security-Policy"));
            Assert.StartsWith("default-src 'none'; script-src 'self'; style-src 'self';", policy, StringComparison.Ordinal);
            Assert.DoesNotContain("unsafe", policy, StringComparison.Ordinal);
            Assert.Equal("no-store", response.Headers.CacheControl!.ToString());
        }
    }

    [Theory]
    [InlineData("/")]
    [InlineData("/page.js")]
    [InlineData("/0000000000000000000000000000000000000000000000aa/")]
    public async Task A_wrong_token_is_refused(string path) => Assert.Equal((HttpStatusCode.Forbidden, "wrong token"), Two(await Ask(path)));

    [Theory]
    [InlineData("localhost")]
    [InlineData("example.org")]
    [InlineData("127.0.0.1")]
    public async Task A_wrong_host_is_refused(string host)
    {
        string port = host == "127.0.0.1" ? "" : $":{Address.Port}";
        Assert.Equal((HttpStatusCode.Forbidden, "wrong host"), Two(await Ask("", null, r => r.Headers.Host = host + port)));
    }

    [Theory]
    [InlineData("http://example.org")]
    [InlineData("null")]
    [InlineData("https://127.0.0.1")]
    public async Task Another_site_can_neither_read_nor_write(string origin)
    {
        void Change(HttpRequestMessage r)
        {
            r.Headers.Remove("Origin");
            r.Headers.Add("Origin", origin);
        }

        string before = session.State.Text.Text;
        Assert.Equal((HttpStatusCode.Forbidden, "wrong origin"), Two(await Ask("", null, Change)));
        const string Edit = """{"ops":[{"op":"set","path":"law.a","value":"9 mS"}]}""";
        Assert.Equal((HttpStatusCode.Forbidden, "wrong origin"), Two(await Ask("edit", Edit, Change)));
        Assert.Equal((HttpStatusCode.Forbidden, "wrong origin"), Two(await Ask("edit", Edit, r => r.Headers.Remove("Origin"))));
        Assert.Equal((HttpStatusCode.Forbidden, "wrong origin"), Two(await Ask("edit", Edit, r => r.Headers.Add("Sec-Fetch-Site", "cross-site"))));
        Assert.Equal(before, session.State.Text.Text);
    }

    [Theory]
    [InlineData("secret.txt")]
    [InlineData("device.toml")]
    [InlineData("%2e%2e/secret.txt")]
    [InlineData("..%2fsecret.txt")]
    [InlineData("x/../../../secret.txt")]
    [InlineData("/etc/hostname")]
    public async Task No_path_leads_to_a_file(string path)
    {
        // By hand, since a client takes dots out of an address.
        using TcpClient tcp = new();
        await tcp.ConnectAsync(IPAddress.Loopback, Address.Port);
        await using NetworkStream stream = tcp.GetStream();
        await stream.WriteAsync(Encoding.ASCII.GetBytes($"GET {Address.AbsolutePath}{path} HTTP/1.1\r\nHost: {Address.Authority}\r\nConnection: close\r\n\r\n"));
        using StreamReader reader = new(stream);
        string answer = await reader.ReadToEndAsync();
        Assert.Matches("^HTTP/1.1 (403|404|400) ", answer);
        Assert.DoesNotContain("not to be read", answer, StringComparison.Ordinal);
        Assert.DoesNotContain("Small bar", answer, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Edits_come_back_as_a_version_or_as_the_messages_of_the_command_line_with_their_place()
    {
        (HttpStatusCode status, string text, _) = await Ask("edit", """{"ops":[{"op":"set","path":"law.a","value":"2 mS"},{"op":"move","name":"tip","x":1e-6,"y":0}]}""");
        Assert.Equal((HttpStatusCode.OK, """{"version":2}"""), (status, text));
        Assert.Equal(2e-3, session.State.Device.Law.AtZeroField.Aa);
        Assert.Equal(1e-6, session.State.Device.Tips[0].At.X);

        (status, text, _) = await Ask("edit", """{"ops":[{"op":"set","path":"drive.current.steps","value":"4.5 \"\n[x]"}]}""");
        Assert.Equal((HttpStatusCode)422, status);
        JsonElement fault = JsonDocument.Parse(text).RootElement.GetProperty("faults")[0];
        Assert.Equal("drive.current.steps", fault.GetProperty("path").GetString());
        Assert.StartsWith("'steps' is text; write a whole number", fault.GetProperty("message").GetString(), StringComparison.Ordinal);
        Assert.StartsWith(folder["device.toml"] + ":", fault.GetProperty("text").GetString(), StringComparison.Ordinal);
        Assert.Equal(2, session.State.Version);

        foreach (string bad in new[] { """{"ops":[]}""", """{"ops":[{"op":"burn"}]}""", """{"ops":[{"op":"drop","name":"nobody"}]}""" })
        {
            Assert.Equal((HttpStatusCode)422, (await Ask("edit", bad)).Status);
        }

        Assert.Equal(HttpStatusCode.BadRequest, (await Ask("edit", "{")).Status);

        // Clearly refused, whether its length is told at the start or not; the connection goes on.
        string lengthy = "{\"gesture\":\"" + new string('x', 3 << 20) + "\"}";
        Assert.Equal((HttpStatusCode.RequestEntityTooLarge, "the request is too long"), Two(await Ask("edit", lengthy)));
        Assert.Equal((HttpStatusCode.RequestEntityTooLarge, "the request is too long"), Two(await Ask("save", lengthy, r => r.Headers.TransferEncodingChunked = true)));
        Assert.Equal((HttpStatusCode.Forbidden, "wrong token"), Two(await Ask("/edit", lengthy)));
        Assert.Equal(2, session.State.Version);
        Assert.Equal(["device.toml", "secret.txt"], folder.Files);
    }

    [Fact]
    public async Task Save_as_stays_in_the_folder_and_a_changed_file_is_not_replaced_silently()
    {
        Assert.Equal((HttpStatusCode)422, (await Ask("save", """{"name":"../x.toml"}""")).Status);
        Assert.Equal(HttpStatusCode.OK, (await Ask("save", """{"name":"x.toml"}""")).Status);
        Assert.Equal(HttpStatusCode.OK, (await Ask("edit", """{"ops":[{"op":"set","path":"law.a","value":"2 mS"}]}""")).Status);
        File.AppendAllText(folder["x.toml"], "# mine\n");
        Assert.Equal(HttpStatusCode.Conflict, (await Ask("save", "{}")).Status);
        Assert.EndsWith("# mine\n", File.ReadAllText(folder["x.toml"]), StringComparison.Ordinal);
        Assert.Equal(HttpStatusCode.OK, (await Ask("save", """{"overwrite":true}""")).Status);
        Assert.Equal(session.State.Text.Text, File.ReadAllText(folder["x.toml"]));
        Assert.Equal(["device.toml", "secret.txt", "x.toml"], folder.Files);
    }

    [Fact]
    public async Task A_trace_is_written_beside_the_device_file_and_nowhere_else()
    {
        const string Shapes = """[{"kind":"pad","name":"w","corners":[0,0,1e-6,0,1e-6,1e-6]}]""";
        Assert.Equal(HttpStatusCode.OK, (await Ask("trace", $$"""{"name":"t.geojson","shapes":{{Shapes}}}""")).Status);
        Assert.Equal(HttpStatusCode.Conflict, (await Ask("trace", $$"""{"name":"t.geojson","shapes":{{Shapes}}}""")).Status);
        Assert.Equal(HttpStatusCode.OK, (await Ask("trace", $$"""{"name":"t.geojson","overwrite":true,"shapes":{{Shapes}}}""")).Status);
        string[] files = Directory.GetFileSystemEntries(folder[""], "*", SearchOption.AllDirectories);
        foreach (string name in new[] { "../t.geojson", "/t.geojson", "x/t.geojson", "..\\t.geojson", "secret.txt", "device.toml", "" })
        {
            (HttpStatusCode status, string text, _) = await Ask("trace", $$"""{"name":"{{name}}","overwrite":true,"shapes":{{Shapes}}}""");
            Assert.Equal((HttpStatusCode)422, status);
            Assert.Contains("plain file name", text, StringComparison.Ordinal);
        }

        Assert.Equal((HttpStatusCode)422, (await Ask("trace", """{"name":"u.geojson","shapes":[{"kind":"blot","corners":[0,0,1,0,1,1]}]}""")).Status);
        Assert.Equal(files, Directory.GetFileSystemEntries(folder[""], "*", SearchOption.AllDirectories));
        Assert.Equal("not to be read", File.ReadAllText(folder["secret.txt"]));
    }

    [Fact]
    public async Task Pages_hear_of_states_and_answers_and_the_server_ends_after_the_last_one_went()
    {
        Task ended = server.Ended(CancellationToken.None);
        using (HttpResponseMessage first = await client.GetAsync(new Uri(Address, "events?page=1&wiring=bar"), HttpCompletionOption.ResponseHeadersRead))
        using (HttpResponseMessage second = await client.GetAsync(new Uri(Address, "events?page=2&wiring=bar"), HttpCompletionOption.ResponseHeadersRead))
        {
            Assert.Equal("text/event-stream", first.Content.Headers.ContentType!.MediaType);
            using StreamReader a = new(await first.Content.ReadAsStreamAsync()), b = new(await second.Content.ReadAsStreamAsync());
            Assert.Equal(HttpStatusCode.OK, (await Ask("edit", """{"ops":[{"op":"set","path":"law.a","value":"2 mS"}]}""")).Status);
            foreach (StreamReader reader in new[] { a, b })
            {
                // Both hear of version 2, and both get its accurate answer.
                bool state = false, answer = false;
                while (!(state && answer))
                {
                    string line = (await reader.ReadLineAsync())!;
                    state |= line.StartsWith("data: {\"version\":2,\"title\":\"Small bar\"", StringComparison.Ordinal);
                    answer |= line.StartsWith("data: {\"version\":2,\"accurate\":true", StringComparison.Ordinal);
                }
            }

            Assert.False(ended.IsCompleted);
        }

        await ended.WaitAsync(TimeSpan.FromMinutes(2));
    }

    [Fact]
    public async Task A_page_that_lost_its_connection_comes_back_to_the_newest_state_and_answer()
    {
        await using OpenServer patient = await OpenServer.Start(session, new OpenOptions { Grace = TimeSpan.FromHours(1) });
        Task ended = patient.Ended(CancellationToken.None);
        Uri events = new(new Uri(patient.Address), "events?page=1&wiring=bar");
        string[] first = await Until(events, "\"accurate\":true");
        Assert.Equal("event: state", first[0]);
        Assert.StartsWith("data: {\"version\":1,", first[1], StringComparison.Ordinal);

        // While it is away the layout changes twice; it is told of the last layout alone.
        foreach (string a in new[] { "2 mS", "3 mS" })
        {
            Assert.Empty(session.Apply((t, _) => t.With("law.a", $"\"{a}\""), null));
        }

        string[] second = await Until(events, "\"version\":3,\"accurate\":true");
        Assert.Equal("event: state", second[0]);
        Assert.StartsWith("data: {\"version\":3,", second[1], StringComparison.Ordinal);
        Assert.Equal(["event: state"], second.Where(l => l == "event: state"));
        Assert.False(ended.IsCompleted);
    }

    // The lines of a page's events up to one with a text; then the connection is dropped.
    private async Task<string[]> Until(Uri events, string text)
    {
        using HttpResponseMessage response = await client.GetAsync(events, HttpCompletionOption.ResponseHeadersRead);
        using StreamReader reader = new(await response.Content.ReadAsStreamAsync());
        List<string> lines = [];
        while (lines.Count == 0 || !lines[^1].Contains(text, StringComparison.Ordinal))
        {
            lines.Add((await reader.ReadLineAsync())!);
        }

        return [.. lines];
    }

    private static (HttpStatusCode Status, string Text) Two((HttpStatusCode Status, string Text, HttpResponseMessage Response) answer) => (answer.Status, answer.Text);
}
