using System.Text;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests;

/// <summary>Runs records given as JSON text through an engine, each in a batch of its own unless told otherwise, and remembers what came out.</summary>
internal sealed class EngineRun
{
    private readonly RecordDecoder _decoder;

    public EngineRun(ScoringEngine engine)
    {
        Engine = engine;
        _decoder = new RecordDecoder(engine.Schema);
    }

    public EngineRun(EngineDefinition definition)
        : this(new ScoringEngine(definition))
    {
    }

    public ScoringEngine Engine { get; }

    public List<(string Id, double Probability, double LogOdds, long Version, Reason[] Reasons)> Scores { get; } = [];

    public List<(long Position, RejectReason Reason)> Rejects { get; } = [];

    public EngineRun Take(params string[] records) => Take(records, batchSize: 1);

    public EngineRun Take(IReadOnlyList<string> records, int batchSize)
    {
        for (int start = 0; start < records.Count; start += batchSize)
        {
            var batch = new RecordBatch(Engine.Schema);
            for (int i = start; i < Math.Min(start + batchSize, records.Count); i++) batch.Add(Encoding.UTF8.GetBytes(records[i]), i + 1);
            _decoder.Decode(batch);
            var scores = Engine.CreateScoreBatch();
            Engine.Process(batch, scores);
            for (int i = 0; i < scores.Count; i++)
            {
                ref readonly var score = ref scores.Scores[i];
                Scores.Add((Encoding.UTF8.GetString(batch.Id(score.Record)), score.Probability, score.LogOdds, score.Version, scores.Reasons(i).ToArray()));
            }
            foreach (int reject in batch.Rejects) Rejects.Add((batch.Record(reject).Position, batch.Record(reject).Reason));
        }
        return this;
    }
}
