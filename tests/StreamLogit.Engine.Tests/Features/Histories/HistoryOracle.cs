using StreamLogit.Engine.Definition;

namespace StreamLogit.Engine.Tests.Features.Histories;

/// <summary>Histories worked out from all events that came before, with nothing summed up and the machine's own exp and log.</summary>
internal sealed class HistoryOracle
{
    private readonly Dictionary<string, List<PastEvent>> _byKey = [];
    private readonly List<PastEvent> _labelled = [];
    private long _clock = long.MinValue;

    /// <summary>The figure of a history of an event, which is not added; null where there is none.</summary>
    public double? Figure(HistoryFeature history, PastEvent now)
    {
        if (KeyOf(history, now) is not { } key) return null;
        var past = _byKey.GetValueOrDefault(key, []);
        long clock = past.Append(now).Max(e => e.Time);
        double Weight(PastEvent e) => Math.Pow(2, -(double)(clock - e.Time) / history.HalfLifeMicroseconds);
        var valued = past.Where(e => e.Amount is not null).ToList();
        double weight = valued.Sum(Weight);
        switch (history.Kind)
        {
            case HistoryKind.Count: return past.Sum(Weight);
            case HistoryKind.Sum: return valued.Sum(e => Weight(e) * e.Amount!.Value);
            case HistoryKind.Mean: return weight < Math.Pow(2, -64) ? null : valued.Sum(e => Weight(e) * e.Amount!.Value) / weight;
            case HistoryKind.Deviation:
                if (now.Amount is null || weight < Math.Pow(2, -64)) return null;
                double mean = valued.Sum(e => Weight(e) * e.Amount!.Value) / weight;
                double variance = valued.Sum(e => Weight(e) * Math.Pow(e.Amount!.Value - mean, 2)) / weight;
                return valued.Select(e => e.Amount).Distinct().Count() < 2 ? 0 : Math.Clamp((now.Amount.Value - mean) / Math.Sqrt(variance), -10, 10);
            case HistoryKind.Gap: return past.Count == 0 ? null : (clock - past.Max(e => e.Time)) / 1e6;
            case HistoryKind.Distinct: return past.Where(e => e.Shop is not null).GroupBy(e => e.Shop).Sum(shop => Weight(shop.MaxBy(e => e.Time)!));
            case HistoryKind.New: return past.Any(e => Math.Max(_clock, now.Time) - e.Time <= history.WithinMicroseconds) ? 0 : 1;
            case HistoryKind.Rate:
                long newest = _labelled.Count == 0 ? 0 : _labelled.Max(e => e.Time);
                double Overall(PastEvent e) => e.Known!.Value.Weight * Math.Pow(2, -(double)(newest - e.Time) / history.HalfLifeMicroseconds);
                double rate = (_labelled.Where(e => e.Known!.Value.Label == 1).Sum(Overall) + 0.5) / (_labelled.Sum(Overall) + 1);
                var known = past.Where(e => e.Known is not null).ToList();
                double bad = known.Where(e => e.Known!.Value.Label == 1).Sum(e => e.Known!.Value.Weight * Weight(e));
                return (bad + history.Prior * rate) / (known.Sum(e => e.Known!.Value.Weight * Weight(e)) + history.Prior);
            default: throw new ArgumentOutOfRangeException(nameof(history));
        }
    }

    public void Add(IEnumerable<HistoryFeature> histories, PastEvent now)
    {
        _clock = Math.Max(_clock, now.Time);
        foreach (string key in histories.Select(h => KeyOf(h, now)).OfType<string>().Distinct())
        {
            if (!_byKey.TryGetValue(key, out var past)) _byKey[key] = past = [];
            past.Add(now);
        }
    }

    public void Learn(PastEvent past, int label, double weight)
    {
        past.Known = (label, weight);
        _labelled.Add(past);
    }

    private static string? KeyOf(HistoryFeature history, PastEvent e)
    {
        var fields = history.Per.Append(history.Kind == HistoryKind.New ? history.Of : null).OfType<string>().Distinct().Order(StringComparer.Ordinal);
        var values = fields.Select(f => (Field: f, Value: f == "card" ? e.Card : e.Shop)).ToList();
        return values.Any(v => v.Value is null) ? null : string.Join('\n', values.Select(v => $"{v.Field}={v.Value}"));
    }
}
