using StreamLogit.Engine;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Benchmarks.Ratios;

/// <summary>Runs JSON Lines through an engine on the calling thread.</summary>
internal sealed class OneThreadReplay
{
    private const int BatchRecords = 4096;
    private readonly ScoringEngine _engine;
    private readonly RecordDecoder _decoder;
    private readonly RecordBatch _batch;
    private readonly ScoreBatch _scores;
    private long _line;

    public OneThreadReplay(EngineDefinition definition)
    {
        _engine = new ScoringEngine(definition) { GiveReasons = false };
        _decoder = new RecordDecoder(_engine.Schema);
        _batch = new RecordBatch(_engine.Schema);
        _scores = _engine.CreateScoreBatch();
    }

    public void Run(ReadOnlySpan<byte> lines)
    {
        while (lines.Length > 0)
        {
            _batch.Clear();
            _scores.Clear();
            while (_batch.Count < BatchRecords && lines.Length > 0)
            {
                int end = lines.IndexOf((byte)'\n');
                _batch.Add(lines[..end], ++_line);
                lines = lines[(end + 1)..];
            }
            _decoder.Decode(_batch);
            _engine.Process(_batch, _scores);
        }
    }

    /// <summary>Fails where a record was rejected: it would have cost less than a good one.</summary>
    public void CheckAllUsed()
    {
        var health = _engine.Health();
        if (health.Rejected > 0) throw new InvalidOperationException($"{health.Rejected} records were rejected: {string.Join(", ", health.RejectsByReason)}");
    }
}
