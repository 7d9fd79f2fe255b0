using System.Diagnostics.Metrics;
using System.Runtime.CompilerServices;
using StreamLogit.Engine.Health;
using StreamLogit.Worker.Telemetry;

namespace StreamLogit.Worker.Tests.Telemetry;

/// <summary>docs/telemetry.md lists the instruments that there are, no more and no fewer.</summary>
public sealed class TelemetryPageTests
{
    [Fact]
    public void Page_ListsEveryInstrumentWithItsKindUnitAndMeaning()
    {
        var instruments = new List<Instrument>();
        using var listener = new MeterListener { InstrumentPublished = (instrument, _) => { if (instrument.Meter.Name.StartsWith("StreamLogit.", StringComparison.Ordinal)) instruments.Add(instrument); } };
        foreach (string type in new[] { "StreamLogit.Pipeline.PipelineInstruments, StreamLogit.Pipeline", "StreamLogit.Kafka.KafkaInstruments, StreamLogit.Kafka" })
            RuntimeHelpers.RunClassConstructor(Type.GetType(type, throwOnError: true)!.TypeHandle);
        using var worker = new WorkerInstruments(
            () => new HealthSnapshot { Total = new HealthFigures(0, 0, 0, 0, 0, 0, 0) }, () => default, () => (0, 0), TimeProvider.System);
        listener.Start();

        var expected = instruments.Select(i => (i.Name, Kind(i), i.Unit ?? "", i.Description ?? "")).Distinct().Order().ToList();

        Assert.True(expected.Count > 40);
        Assert.Equal(expected, InstrumentTable.Rows.Select(row => (row.Name, row.Kind, row.Unit, row.Meaning)).Order());
        Assert.All(expected, instrument => Assert.Matches(@"^(messaging|streamlogit)(\.[a-z][a-z0-9_]*)+$", instrument.Name));
    }

    [Fact]
    public void Page_TellsTheBoundsOfTheHistograms()
    {
        string page = RepositoryFiles.Read("docs/telemetry.md");
        var bounds = new List<string>();
        using var listener = new MeterListener
        {
            InstrumentPublished = (instrument, _) =>
            {
                if (instrument is Histogram<double> { Meter.Name: "StreamLogit.Pipeline" } seconds) bounds.Add(string.Join(", ", seconds.Advice!.HistogramBucketBoundaries!) + " seconds");
                if (instrument is Histogram<int> { Meter.Name: "StreamLogit.Pipeline" } records) bounds.Add(string.Join(", ", records.Advice!.HistogramBucketBoundaries!) + " records");
            },
        };
        RuntimeHelpers.RunClassConstructor(Type.GetType("StreamLogit.Pipeline.PipelineInstruments, StreamLogit.Pipeline", throwOnError: true)!.TypeHandle);
        listener.Start();

        Assert.Equal(4, bounds.Count);
        Assert.All(bounds, text => Assert.Contains(text, page, StringComparison.Ordinal));
    }

    private static string Kind(Instrument instrument)
    {
        string type = instrument.GetType().Name;
        if (type.Contains("UpDownCounter", StringComparison.Ordinal)) return "up-down counter";
        if (type.Contains("Counter", StringComparison.Ordinal)) return "counter";
        return type.Contains("Gauge", StringComparison.Ordinal) ? "gauge" : "histogram";
    }
}
