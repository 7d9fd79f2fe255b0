using System.Text;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline;

namespace StreamLogit.Tests.Contracts;

/// <summary>A batch of records and made-up scores for it, for sinks.</summary>
internal sealed record ScoredBatch(RecordBatch Records, ScoreBatch Scores)
{
    /// <summary>The records of those numbers: two events, then a reject, and so on.</summary>
    public static ScoredBatch Create(int first, int count)
    {
        var batch = Of(Schemas.Definition, first, [.. Enumerable.Range(first, count).Select(i =>
            i % 3 == 2 ? "{\"id\":" : $$"""{"id":"t-{{i}}","time":"2026-03-01T08:15:30Z"}""")]);
        for (int i = 0; i < count; i++)
        {
            if (batch.Records.Records[i].Kind != RecordKind.Event)
            {
                batch.Records.ListReject(i);
                continue;
            }
            int number = first + i;
            ref var score = ref batch.Scores.Add(out var reasons);
            score = new Score { Record = i, Probability = 1.0 / (number + 1), LogOdds = -Math.Log(number), Version = number, ReasonCount = 1 };
            reasons[0] = new Reason(number % 2, number - 0.5);
        }
        return batch;
    }

    /// <summary>Records from a position on, decoded, and no scores. A character of a record stands for a byte.</summary>
    public static ScoredBatch Of(EngineDefinition definition, long first, params string[] records)
    {
        var schema = new RecordSchema(definition);
        var batch = new RecordBatch(schema) { Origin = "quay.jsonl" };
        for (int i = 0; i < records.Length; i++) batch.Add(Encoding.Latin1.GetBytes(records[i]), first + i);
        new RecordDecoder(schema).Decode(batch);
        return new ScoredBatch(batch, new ScoreBatch(definition.Decision.Reasons));
    }

    public void WriteTo(IScoreSink sink) => sink.Write(Records, Scores);
}
