using System.Text.Json;
using BenchmarkDotNet.Attributes;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Scenarios;

namespace StreamLogit.Benchmarks.Records;

/// <summary>
/// The decoder against Utf8JsonReader reading all tokens of the same records and doing nothing with them.
/// The times are those of <see cref="Count"/> records.
/// </summary>
[MemoryDiagnoser]
public class RecordDecoderBenchmarks
{
    private const int Count = 20_000;
    private const int BatchRecords = 1024;

    private readonly List<ReadOnlyMemory<byte>> _records = [];
    private readonly List<RecordBatch> _batches = [];
    private RecordDecoder _decoder = null!;

    /// <summary>The stream that the records come from.</summary>
    [Params("ferry-tickets", "pump-stations")]
    public string Scenario { get; set; } = "";

    [GlobalSetup]
    public void Prepare()
    {
        using var stream = new MemoryStream();
        ScenarioCatalog.Create(Scenario, new ScenarioOptions { Records = Count }).Write(stream);
        ReadOnlyMemory<byte> rest = stream.ToArray();
        var schema = new RecordSchema(Definition());
        _decoder = new RecordDecoder(schema);
        for (int line = 0; rest.Length > 0; line++)
        {
            int end = rest.Span.IndexOf((byte)'\n');
            _records.Add(rest[..end]);
            if (line % BatchRecords == 0) _batches.Add(new RecordBatch(schema));
            _batches[^1].Add(rest.Span[..end], line + 1);
            rest = rest[(end + 1)..];
        }
        Decode();
        foreach (var batch in _batches)
        {
            foreach (ref var record in batch.Records)
            {
                // A reject would cost something else than a record that is used.
                if (record.Kind == RecordKind.Reject) throw new InvalidOperationException(record.Detail);
            }
        }
    }

    [Benchmark(Baseline = true)]
    public void ReadTokens()
    {
        foreach (var record in _records)
        {
            var reader = new Utf8JsonReader(record.Span);
            while (reader.Read()) { }
        }
    }

    [Benchmark]
    public void Decode()
    {
        foreach (var batch in _batches) _decoder.Decode(batch);
    }

    private EngineDefinition Definition() => Scenario == "ferry-tickets"
        ? DefinitionOf(
            "stolen", "paid",
            new NumberFeature("price", NumberScale.Log1p), new NumberFeature("passengers", NumberScale.None), new NumberFeature("daysAhead", NumberScale.None),
            new CategoryFeature(["country"]), new CategoryFeature(["channel"]), new CategoryFeature(["route"]), new CategoryFeature(["vehicle"]),
            new CategoryFeature(["gift"]), new CategoryFeature(["card"]))
        : DefinitionOf(
            "true", "false",
            new CategoryFeature(["station", "pump"]), new NumberFeature("speed", NumberScale.None), new NumberFeature("flow", NumberScale.None),
            new NumberFeature("pressure", NumberScale.None), new NumberFeature("bearing.vibration", NumberScale.None),
            new NumberFeature("bearing.temperature", NumberScale.None));

    private EngineDefinition DefinitionOf(string bad, string good, params FeatureOptions[] features) => new()
    {
        Stream = Scenario,
        Record = new RecordOptions { LabelValues = new RecordOptions().LabelValues.Clear().Add(bad, 1).Add(good, 0) },
        Features = [.. features],
    };
}
