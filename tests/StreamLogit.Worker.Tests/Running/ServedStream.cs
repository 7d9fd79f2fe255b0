namespace StreamLogit.Worker.Tests.Running;

/// <summary>A worker that serves its page and follows a recording, which can be made to grow.</summary>
internal sealed class ServedStream : IDisposable
{
    private const string Announcement = "The health page is at ";

    private readonly TemporaryFolder _folder = new();
    private readonly StreamLogitProcess _worker;
    private readonly string[] _records;
    private int _given;

    /// <param name="definition">The definition's text, without source, scores, rejects, state and listen.</param>
    /// <param name="records">The records.</param>
    /// <param name="given">How many of them are there at first.</param>
    /// <param name="key">The access key, or null for none.</param>
    /// <param name="listen">The key <c>listen</c> of the definition, or null for any free port of loopback.</param>
    public ServedStream(string definition, string[] records, int given, string? key = null, string? listen = null)
    {
        _records = records;
        Give(given);
        string path = _folder.Write("definition.json", definition);
        List<string> arguments =
        [
            StreamLogitProcess.Program, "run", path, "--set", $"source.file={_folder["records.jsonl"]}", "--set", "source.follow=true", "--set", "source.format=jsonl",
            "--set", $"scores.file={_folder["scores.jsonl"]}", "--set", $"rejects.file={_folder["rejects.jsonl"]}", "--set", $"state.folder={_folder["state"]}",
        ];
        listen ??= key is null ? "http://127.0.0.1:0" : "{\"url\":\"http://127.0.0.1:0\",\"keyVariable\":\"PAGE_KEY\"}";
        arguments.AddRange(["--set", $"listen={listen}"]);
        _worker = StreamLogitProcess.Start("dotnet", [.. arguments], key is null ? [] : [("PAGE_KEY", key)], []);
        string line = _worker.WaitForMessage(Announcement);
        Address = line[(line.IndexOf(Announcement, StringComparison.Ordinal) + Announcement.Length)..].Trim();
    }

    /// <summary>Where the page is, without a slash at the end.</summary>
    public string Address { get; }

    /// <summary>The recording of a demo stream with its definition, and an alarm that is raised.</summary>
    public static ServedStream OfFerryTickets(int records = 12_000, string? key = null) => new(
        File.ReadAllText(DemoStreams.File("ferry-tickets.json")).Replace(
            "\"alarms\": [", "\"alarms\": [ { \"metric\": \"events\", \"window\": \"1d\", \"above\": 1, \"minimum\": 0 },",
            StringComparison.Ordinal),
        File.ReadAllLines(DemoStreams.File("ferry-tickets.jsonl")), records, key);

    /// <summary>Ten records of a demo stream, served as this says.</summary>
    public static ServedStream Listening(string listen) => new(
        File.ReadAllText(DemoStreams.File("ferry-tickets.json")), File.ReadAllLines(DemoStreams.File("ferry-tickets.jsonl")), given: 10, listen: listen);

    /// <summary>Lets the recording grow until it holds so many records.</summary>
    public void Give(int records)
    {
        File.AppendAllLines(_folder["records.jsonl"], _records[_given..records]);
        _given = records;
    }

    public void Dispose()
    {
        _worker.Dispose();
        _folder.Dispose();
    }
}
