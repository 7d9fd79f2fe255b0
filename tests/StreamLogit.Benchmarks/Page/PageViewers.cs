using System.Diagnostics;
using System.Globalization;

namespace StreamLogit.Benchmarks.Page;

/// <summary>
/// What viewers of the health page cost the worker that serves it: the processor time of the process with them less that without, in turns.
/// </summary>
internal static class PageViewers
{
    private const int Rounds = 3;
    private const string Announcement = "The health page is at ";
    private static readonly TimeSpan Interval = TimeSpan.FromSeconds(10);
    private static readonly TimeSpan Settling = TimeSpan.FromSeconds(2);

    // What is looked at: the whole stream by most, and other windows and slices by some.
    private static readonly string[] Queries = ["", "", "?window=7d", "?window=30d&past=60d", "?window=7d&slice=channel%3Dweb"];

    public static async Task<int> PrintAsync(int viewers)
    {
        string folder = Directory.CreateTempSubdirectory("streamlogit-viewers-").FullName;
        try
        {
            using var worker = await StartAsync(folder);
            var address = new Uri((await ReadAddressAsync(worker)).Trim());
            double with = 0, without = 0;
            // What is compiled for the first viewers is not what viewers cost.
            double first = await MeasureAsync(worker, address, viewers);
            await MeasureAsync(worker, address, viewers);
            for (int round = 0; round < Rounds; round++)
            {
                without += await MeasureAsync(worker, address, 0);
                with += await MeasureAsync(worker, address, viewers);
            }
            Console.WriteLine(string.Create(CultureInfo.InvariantCulture,
                $"{viewers} viewers\t{(with - without) / Rounds:P2} of a core\t(with {with / Rounds:P2}, without {without / Rounds:P2}, the first {Interval.TotalSeconds} s {first:P2})"));
            worker.Kill();
            await worker.WaitForExitAsync();
            return 0;
        }
        finally
        {
            Directory.Delete(folder, recursive: true);
        }
    }

    private static async Task<Process> StartAsync(string folder)
    {
        string program = Path.Combine(AppContext.BaseDirectory, "streamlogit.dll"), recording = Path.Combine(folder, "records.jsonl");
        using (var synth = Start([program, "synth", "ferry-tickets", "--records", "200000", "--events-per-day", "2000"]))
        {
            await using var file = File.Create(recording);
            await synth.StandardOutput.BaseStream.CopyToAsync(file);
            await synth.WaitForExitAsync();
        }
        string definition = Path.Combine(folder, "ferry-tickets.json");
        await File.WriteAllTextAsync(definition, """
            {
              "stream": "ferry-tickets",
              "record": { "labelValues": { "stolen": 1, "paid": 0 } },
              "features": [ { "number": "price", "scale": "standard" }, { "category": "country" }, { "category": "channel" }, { "category": "route" }, { "category": "gift" } ],
              "learning": { "slots": 4096, "startProbability": 0.01 },
              "decision": { "cutoff": 0.2 },
              "health": { "windows": ["1d", "7d", "30d"], "slices": ["channel", "route"] },
              "source": { "file": "records.jsonl" }, "scores": { "file": "scores.jsonl" }, "state": { "folder": "state" },
              "listen": "http://127.0.0.1:0"
            }
            """);
        // An hour of the stream in a second: some hundred records, and curves that move with every snapshot.
        return Start([program, "run", definition, "--speed", "3600x"]);
    }

    private static async Task<string> ReadAddressAsync(Process worker)
    {
        while (await worker.StandardError.ReadLineAsync() is { } line)
            if (line.IndexOf(Announcement, StringComparison.Ordinal) is >= 0 and var at) return line[(at + Announcement.Length)..];
        throw new InvalidOperationException("The worker ended without serving its page.");
    }

    /// <summary>Cores that the worker takes while so many viewers follow its page.</summary>
    private static async Task<double> MeasureAsync(Process worker, Uri address, int viewers)
    {
        using var stop = new CancellationTokenSource();
        using var client = new HttpClient();
        var following = Enumerable.Range(0, viewers).Select(i => FollowAsync(client, new Uri(address, "/data/events" + Queries[i % Queries.Length]), stop.Token)).ToList();
        await Task.Delay(Settling);
        worker.Refresh();
        var before = worker.TotalProcessorTime;
        long start = Stopwatch.GetTimestamp();
        await Task.Delay(Interval);
        worker.Refresh();
        double cores = (worker.TotalProcessorTime - before) / Stopwatch.GetElapsedTime(start);
        await stop.CancelAsync();
        foreach (var viewer in following)
            if (await viewer < (int)Interval.TotalSeconds / 2) throw new InvalidOperationException("A viewer hardly saw anything.");
        return cores;
    }

    private static async Task<int> FollowAsync(HttpClient client, Uri address, CancellationToken stop)
    {
        int views = 0;
        try
        {
            using var reader = new StreamReader(await client.GetStreamAsync(address, stop));
            while (await reader.ReadLineAsync(stop) is { } line)
                if (line == "event: view") views++;
        }
        catch (OperationCanceledException)
        {
            // The measurement is over.
        }
        return views;
    }

    private static Process Start(string[] arguments) =>
        Process.Start(new ProcessStartInfo("dotnet", arguments) { RedirectStandardOutput = true, RedirectStandardError = arguments[1] == "run" })!;
}
