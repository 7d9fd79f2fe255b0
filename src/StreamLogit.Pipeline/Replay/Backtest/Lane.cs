using StreamLogit.Engine;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>One definition on its way through the recordings: its engine, the hash of its scores, and the labels of the batch at hand.</summary>
internal sealed class Lane : IDisposable
{
    private readonly TemporaryArchive _archive = new();
    private readonly ScoreHash _hash = new();
    private readonly ScoreBatch _scores;
    private readonly IScoreSink? _sink;
    private readonly NightlyBaseline? _nightly;
    private readonly List<TapedLabel> _labels = [];

    /// <param name="definition">What its engine computes.</param>
    /// <param name="sink">Where its scores go as well, started, or null.</param>
    /// <param name="nightly">What is shown its labelled events as well, or null.</param>
    public Lane(EngineDefinition definition, IScoreSink? sink, NightlyBaseline? nightly)
    {
        Engine = new ScoringEngine(definition, _archive) { GiveReasons = sink is not null, Labelled = Tape };
        _scores = Engine.CreateScoreBatch();
        _sink = sink;
        _nightly = nightly;
    }

    public ScoringEngine Engine { get; }

    /// <summary>Which of the shared batches it takes.</summary>
    public int Schema { get; set; }

    /// <summary>The labels that became known in the batch run last.</summary>
    public List<TapedLabel> Labels => _labels;

    /// <summary>Runs a batch of its own through the engine.</summary>
    public void Run(RecordBatch records)
    {
        _labels.Clear();
        _nightly?.Clear();
        _scores.Clear();
        Engine.Process(records, _scores);
        _hash.Write(records, _scores);
        _sink?.Write(records, _scores);
    }

    /// <summary>Ends the stream, so that labels to come become known and labels that still wait for their event count as rejects.</summary>
    public void End(RecordBatch empty)
    {
        _labels.Clear();
        _nightly?.Clear();
        empty.Clear();
        Engine.End(empty);
    }

    public LaneResult Result(string name, string effectiveJson, DecisionFigures decisions)
    {
        _sink?.Flush();
        return new LaneResult(name, effectiveJson, Engine.Health(), _hash.ToHexString(), decisions);
    }

    public HealthSnapshot Health() => Engine.Health();

    public void Dispose()
    {
        _hash.Dispose();
        _archive.Dispose();
    }

    private void Tape(in LabelledEvent labelled)
    {
        _labels.Add(new TapedLabel(
            labelled.IdHash, labelled.LogOdds, labelled.Label, labelled.Weight, labelled.ScoredAtMicroseconds, labelled.KnownAtMicroseconds));
        _nightly?.Take(labelled);
    }
}
