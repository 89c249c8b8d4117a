using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Sessions;
using FieldSolve.Tests.EndToEndTests;

namespace FieldSolve.Tests.SessionsTests;

/// <summary>Changes, undo and saving of a device file.</summary>
public sealed class EditSessionTests : IDisposable
{
    private readonly TempFolder folder = new("session");

    public void Dispose() => folder.Dispose();

    private EditSession Open(string text = SmallDevice.Text, string name = "device.toml") => EditSession.Open(folder.Write(name, text)).Session!;

    private EditSession Sample(string name)
    {
        foreach (string file in Directory.GetFiles(Path.Combine(Repository.Root, "meshes")))
        {
            File.Copy(file, folder[Path.GetFileName(file)], overwrite: true);
        }

        return EditSession.Open(folder[name]).Session!;
    }

    private static Contact Named(EditSession session, string name) => session.State.Device.Contacts.Single(c => c.Name == name);

    private static IReadOnlyList<Fault> Move(EditSession session, string name, Point2 to, string? gesture = null) =>
        session.Apply((t, d) => LayoutEdit.Move(t, d, name, to), gesture);

    [Fact]
    public void A_contact_of_a_ring_moves_alone_and_the_others_stay_to_the_last_digits()
    {
        EditSession session = Sample("disc-12.toml");
        SheetDevice before = session.State.Device;
        Assert.Empty(Move(session, "c4", new Point2(4.2e-6, 0).Turned(80 * Math.PI / 180)));
        for (int k = 0; k < 12; k++)
        {
            double degrees = k == 3 ? 80 : 30 * k;
            Point2 middle = session.State.Device.Contacts[k].Middle;
            Assert.Equal(before.Contacts[k].Name, session.State.Device.Contacts[k].Name);
            Assert.Equal(0, Point2.Distance(middle, new Point2(4e-6, 0).Turned(degrees * Math.PI / 180)), 4e-6 * 1e-8);
            Assert.Equal(before.Contacts[k].Width, session.State.Device.Contacts[k].Width, 1e-18);
        }

        // The ring that [turn] steps round is gone, so [turn] no longer names it.
        Assert.Equal("c", before.Turn?.Around);
        Assert.Null(session.State.Device.Turn!.Around);
        Assert.StartsWith(File.ReadAllText(folder["disc-12.toml"])[..400], session.State.Text.Text, StringComparison.Ordinal);
    }

    [Fact]
    public void A_stretch_slides_along_its_edge_by_shift_and_a_ring_s_own_contact_by_its_angle()
    {
        EditSession session = Open();
        Assert.Empty(Move(session, "top 1", new Point2(-1.5e-6, 3e-6)));
        Assert.Equal(-1.5e-6, Named(session, "top 1").Middle.X, 1e-9);
        Assert.Equal(2e-6, Named(session, "top 1").Middle.Y, 1e-12);

        // The edge runs counter-clockwise, so to the left along the top: +0.5 um of x is a shift of -0.5 um.
        Assert.Equal("-0.5 um", session.State.Text.Find("contact[2].shift")!.Value);
        Assert.Empty(Move(session, "tip", new Point2(1e-6, -0.5e-6)));
        Assert.Equal(new Point2(1e-6, -0.5e-6), session.State.Device.Tips[0].At);
        Assert.Throws<LayoutEditException>(() => Move(session, "nobody", default));
    }

    [Theory]
    [InlineData("under")]  // corners in the device file
    [InlineData("t1")]     // corners in a file of pads
    public void A_pad_is_carried_with_all_its_corners(string name)
    {
        EditSession session = Sample("flake.toml");
        Contact before = Named(session, name);
        Point2 by = new(0.15e-6, -0.1e-6);
        Assert.Empty(Move(session, name, before.Middle + by));
        Contact after = Named(session, name);
        Assert.Equal(before.Shape.Count, after.Shape.Count);
        Assert.All(before.Shape.Zip(after.Shape), p => Assert.Equal(0, Point2.Distance(p.First.Start + by, p.Second.Start), 2e-9));
    }

    [Fact]
    public void Undo_gives_the_same_bytes_and_a_drag_is_one_change()
    {
        EditSession session = Open();
        string start = session.State.Text.Text;
        for (int k = 1; k <= 50; k++)
        {
            Assert.Empty(Move(session, "tip", new Point2(k * 1e-8, 0), "drag 1"));
        }

        string dragged = session.State.Text.Text;
        Assert.Empty(Move(session, "tip", new Point2(0, 1e-7), "drag 2"));
        string moved = session.State.Text.Text;
        Assert.True(session.Undo());
        Assert.Equal(dragged, session.State.Text.Text);
        Assert.True(session.Undo());
        Assert.Equal(start, session.State.Text.Text);
        Assert.True(session.State.IsSaved);
        Assert.False(session.Undo());
        Assert.True(session.Redo() && session.Redo());
        Assert.Equal(moved, session.State.Text.Text);
        Assert.False(session.Redo());
        Assert.Equal(SmallDevice.Text, File.ReadAllText(folder["device.toml"]));
    }

    [Fact]
    public void A_bad_change_gives_the_message_of_the_command_line_and_moves_nothing()
    {
        EditSession session = Open();
        SessionState before = session.State;
        Fault fault = Assert.Single(session.Apply((t, _) => t.With("law.a", "\"4 S/m\""), null));
        Assert.Contains("a sheet conductance is wanted", fault.Message, StringComparison.Ordinal);
        Assert.NotEmpty(Move(session, "top 1", Named(session, "top 2").Middle));
        Assert.Equal(before, session.State);
        Assert.NotEmpty(session.Apply((_, _) => new EditableToml("[drive"), null));
        Assert.Equal(before, session.State);
    }

    [Fact]
    public void Save_keeps_what_was_not_touched_and_notices_another_writer()
    {
        EditSession session = Open();
        session.Apply((t, _) => t.With("law.a", "\"2 mS\""), null);
        Assert.Equal(SaveOutcome.Saved, session.Save(overwrite: false));
        Assert.Equal(SmallDevice.Text.Replace("a = \"1 mS\"", "a = \"2 mS\"", StringComparison.Ordinal), File.ReadAllText(folder["device.toml"]));
        Assert.True(session.State.IsSaved);

        File.AppendAllText(folder["device.toml"], "\n# somebody else\n");
        session.CheckDisk();
        Assert.True(session.State.ChangedOnDisk);
        session.Apply((t, _) => t.With("law.a", "\"3 mS\""), null);
        Assert.Equal(SaveOutcome.ChangedOnDisk, session.Save(overwrite: false));
        Assert.EndsWith("# somebody else\n", File.ReadAllText(folder["device.toml"]), StringComparison.Ordinal);
        Assert.Empty(session.Reload());
        Assert.EndsWith("# somebody else\n", session.State.Text.Text, StringComparison.Ordinal);
        Assert.False(session.State.ChangedOnDisk);
        Assert.True(session.Undo());
        Assert.Equal(SaveOutcome.Saved, session.Save(overwrite: false));
        Assert.Contains("a = \"3 mS\"", File.ReadAllText(folder["device.toml"]), StringComparison.Ordinal);
        Assert.Equal(["device.toml"], folder.Files);
    }

    [Theory]
    [InlineData("../out.toml")]
    [InlineData("/out.toml")]
    [InlineData("sub/out.toml")]
    [InlineData("..\\out.toml")]
    [InlineData("out.txt")]
    [InlineData(".toml")]
    [InlineData("")]
    [InlineData("a\n.toml")]
    public void Save_as_takes_plain_names_beside_the_device_file_only(string name)
    {
        EditSession session = Open();
        Assert.Throws<LayoutEditException>(() => session.SaveAs(name, overwrite: true));
        Assert.Equal(["device.toml"], folder.Files);
    }

    [Fact]
    public void Save_as_does_not_replace_unasked_and_the_session_goes_on_with_the_new_file()
    {
        EditSession session = Open();
        folder.Write("there.toml", "mine");
        Assert.Equal(SaveOutcome.Exists, session.SaveAs("there.toml", overwrite: false));
        Assert.Equal("mine", File.ReadAllText(folder["there.toml"]));
        Assert.Equal(SaveOutcome.Saved, session.SaveAs("new.toml", overwrite: false));
        Assert.Equal(folder["new.toml"], session.State.Path);
        Assert.Equal(SmallDevice.Text, File.ReadAllText(folder["new.toml"]));
    }

    [Fact]
    public void Contacts_tips_and_wirings_come_and_go()
    {
        EditSession session = Open();
        Point2 at = new(0, 2.4e-6);
        Assert.Empty(session.Apply((t, d) => LayoutParts.Add(t, d, "edge", at), null));
        Assert.Equal(0, Point2.Distance(new(0, 2e-6), Named(session, "e1").Middle), 1e-9);
        Assert.Empty(session.Apply((t, d) => LayoutParts.Add(t, d, "point", new(1e-6, 0)), null));
        Assert.Empty(session.Apply((t, d) => LayoutParts.Add(t, d, "pad", new(3e-6, 0)), null));
        Assert.Empty(session.Apply((t, d) => LayoutParts.Add(t, d, "wiring", default), null));
        Assert.Equal(["bar", "reversed"], session.State.Device.Wirings.Select(w => w.Name));
        foreach (string name in new[] { "e1", "p1", "pad1", "reversed" })
        {
            Assert.Empty(session.Apply((t, d) => LayoutParts.Drop(t, d, name), null));
        }

        Assert.Equal(SmallDevice.Text.Trim(), session.State.Text.Text.Trim());

        // A contact that a wiring names cannot go.
        Assert.NotEmpty(session.Apply((t, d) => LayoutParts.Drop(t, d, "left"), null));
    }

    [Fact]
    public void A_file_that_says_no_device_or_no_drive_is_not_opened()
    {
        (EditSession? none, IReadOnlyList<Fault> faults) = EditSession.Open(folder.Write("bad.toml", SmallDevice.Text.Replace("1 mS", "1 mm", StringComparison.Ordinal)));
        Assert.Null(none);
        Assert.Contains("a sheet conductance is wanted", faults[0].Message, StringComparison.Ordinal);
        string bare = SmallDevice.Text[..SmallDevice.Text.IndexOf("[drive]", StringComparison.Ordinal)];
        (none, faults) = EditSession.Open(folder.Write("bare.toml", bare));
        Assert.Null(none);
        Assert.StartsWith("the file has no [drive]; add one", Assert.Single(faults).Message, StringComparison.Ordinal);
        Assert.Equal("the file does not exist", EditSession.Open(folder["gone.toml"]).Faults.Single().Message);

        // Nor does a change take it away.
        EditSession session = Open();
        Assert.Equal("without a [drive] there is nothing to compute", Assert.Single(session.Apply((t, _) => t.Without("drive"), null)).Message);
        Assert.False(session.State.CanUndo);
        Assert.Equal(1, session.State.Version);
    }

    [Fact]
    public void A_file_that_is_gone_counts_as_changed_and_is_written_when_asked()
    {
        EditSession session = Open();
        int told = 0;
        session.Changed += (_, _) => told++;
        session.CheckDisk();
        Assert.Equal(0, told);
        File.Delete(folder["device.toml"]);
        session.CheckDisk();
        session.CheckDisk();
        Assert.Equal((1, true), (told, session.State.ChangedOnDisk));
        Assert.Throws<FileNotFoundException>(() => session.Reload());
        Assert.Equal(SaveOutcome.ChangedOnDisk, session.Save(overwrite: false));
        Assert.Empty(folder.Files);
        Assert.Equal(SaveOutcome.Saved, session.Save(overwrite: true));
        Assert.Equal(SmallDevice.Text, File.ReadAllText(folder["device.toml"]));
        Assert.False(session.State.ChangedOnDisk);
    }

    [Fact]
    public void Save_as_replaces_when_asked_but_never_a_folder()
    {
        EditSession session = Open();
        folder.Write("there.toml", "mine");
        Directory.CreateDirectory(folder["folder.toml"]);
        Assert.Equal(SaveOutcome.Exists, session.SaveAs("folder.toml", overwrite: true));
        Assert.Equal(SaveOutcome.Saved, session.SaveAs("there.toml", overwrite: true));
        Assert.Equal(SmallDevice.Text, File.ReadAllText(folder["there.toml"]));
        Assert.Throws<LayoutEditException>(() => session.SaveAs(new string('a', 200) + ".toml", overwrite: true));
    }

    [PosixFact]
    public void Save_as_does_not_follow_a_link()
    {
        EditSession session = Open();
        string other = folder.Write("other.txt", "mine");
        File.CreateSymbolicLink(folder["link.toml"], other);
        Assert.Equal(SaveOutcome.Exists, session.SaveAs("link.toml", overwrite: true));
        Assert.Equal("mine", File.ReadAllText(other));
    }

    [Fact]
    public void A_file_that_became_faulty_is_not_taken_and_one_that_is_the_same_changes_nothing()
    {
        EditSession session = Open();
        Assert.Empty(session.Reload());
        Assert.Equal((1, false), (session.State.Version, session.State.CanUndo));
        File.WriteAllText(folder["device.toml"], SmallDevice.Text + "[drive]\n");
        SessionState before = session.State;
        Assert.NotEmpty(session.Reload());
        Assert.Equal(before, session.State);
    }

    [Fact]
    public void Files_beside_the_device_are_read_anew_and_an_undo_to_what_they_forbid_is_none()
    {
        EditSession session = Sample("flake.toml");
        string pads = File.ReadAllText(folder["flake-pads.geojson"]);
        Point2 before = Named(session, "t1").Middle;
        Assert.Empty(session.Apply((t, _) => t.With("title", "\"x\""), null));
        int version = session.State.Version;
        File.WriteAllText(folder["flake-pads.geojson"], pads.Replace("\"t1\"", "\"t9\"", StringComparison.Ordinal));
        Assert.Contains("has no polygon named 't1'", session.ReadFiles()[0].Message, StringComparison.Ordinal);
        Assert.Equal((version, before), (session.State.Version, Named(session, "t1").Middle));
        Assert.False(session.Undo());
        Assert.Equal("x", session.State.Device.Title);
        File.WriteAllText(folder["flake-pads.geojson"], pads);
        Assert.Empty(session.ReadFiles());
        Assert.True(session.State.Version > version);
        Assert.True(session.Undo());
    }

    [Fact]
    public void A_change_that_changes_nothing_is_no_step_and_a_thousand_steps_are_kept()
    {
        EditSession session = Open("""
            [sheet]
            bar = { length = "12 um", width = "4 um" }
            [law]
            kind = "ohmic"
            a = "1 mS"
            b = "1 mS"
            [[contact]]
            name = "left"
            edge = { end = "left" }
            [[contact]]
            name = "right"
            edge = { end = "right" }
            [[wiring]]
            name = "bar"
            source = "left"
            drain = "right"
            [drive]
            current = { from = "0 uA", to = "30 uA", steps = 4 }
            """);
        Assert.Empty(session.Apply((t, _) => t, null));
        Assert.Equal(1, session.State.Version);
        for (int k = 0; k < 1003; k++)
        {
            Assert.Empty(session.Apply((t, _) => t.With("title", $"\"{k}\""), null));
        }

        int undone = 0;
        while (session.Undo())
        {
            undone++;
        }

        Assert.Equal((1000, "2"), (undone, session.State.Device.Title));
    }
}
