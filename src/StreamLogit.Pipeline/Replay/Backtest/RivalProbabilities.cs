using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>
/// Somebody else's probabilities, read from a field of the events and kept until the labels come. They are read apart from the engine's fields, so
/// that they change no score. Memory goes with the events that await their label.
/// </summary>
internal sealed class RivalProbabilities(long waitMicroseconds)
{
    // A probability of 0 or 1 that turns out wrong would cost infinitely much.
    private const double Least = 1e-9;
    private readonly Dictionary<ulong, double> _logOdds = [];
    private readonly Queue<(long DueMicroseconds, ulong IdHash)> _expiries = new();
    private long _clock = long.MinValue;

    /// <summary>Events whose field held no number from 0 to 1.</summary>
    public long Unusable { get; private set; }

    /// <summary>The schema that reads the field of a definition's records.</summary>
    public static RecordSchema SchemaOf(EngineDefinition definition, string field) =>
        new(definition with { Features = [new NumberFeature(field, NumberScale.None)] });

    /// <summary>Takes the probabilities of a batch decoded with that schema.</summary>
    public void Take(RecordBatch records)
    {
        for (int i = 0; i < records.Count; i++)
        {
            ref readonly var record = ref records.Record(i);
            if (record.Kind is not (RecordKind.Event or RecordKind.LabelledEvent)) continue;
            var field = records.Fields(i)[0];
            _clock = Math.Max(_clock, record.TimeMicroseconds);
            if (!field.IsPresent) continue;
            if (!(field.Number >= 0 && field.Number <= 1))
            {
                Unusable++;
                continue;
            }
            double p = Math.Clamp(field.Number, Least, 1 - Least);
            if (_logOdds.TryAdd(record.IdHash, Math.Log(p / (1 - p)))) _expiries.Enqueue((_clock + waitMicroseconds, record.IdHash));
        }
    }

    /// <summary>The log-odds of an event, or NaN where it had none.</summary>
    public double LogOddsOf(ulong idHash) => _logOdds.GetValueOrDefault(idHash, double.NaN);

    /// <summary>Forgets what has waited long enough for its label. Only when the labels of the batch have been asked for.</summary>
    public void Forget()
    {
        while (_expiries.TryPeek(out var first) && first.DueMicroseconds < _clock)
        {
            _expiries.Dequeue();
            _logOdds.Remove(first.IdHash);
        }
    }
}
