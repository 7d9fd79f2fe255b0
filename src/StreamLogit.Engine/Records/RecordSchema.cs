using System.Collections.Immutable;
using StreamLogit.Engine.Definition;

namespace StreamLogit.Engine.Records;

/// <summary>The fields that the features and slices of a definition read, each once, and the parts that every record has.</summary>
public sealed class RecordSchema
{
    private readonly Dictionary<string, int> _indices = new(StringComparer.Ordinal);

    /// <summary>Collects the fields of a definition's features, and then of its slices, in the order in which they are first named.</summary>
    public RecordSchema(EngineDefinition definition)
    {
        ArgumentNullException.ThrowIfNull(definition);
        Options = definition.Record;
        var fields = new List<(string Path, FieldUse Use)>();
        foreach (var feature in definition.Features)
        {
            switch (feature)
            {
                case NumberFeature number: Add(number.Field, FieldUse.Number); break;
                case NumberCycleFeature cycle: Add(cycle.Field, FieldUse.Number); break;
                case BucketFeature bucket: Add(bucket.Field, FieldUse.Number); break;
                case TextFeature text: Add(text.Field, FieldUse.Category); break;
                case CategoryFeature category:
                    foreach (var path in category.Fields) Add(path, FieldUse.Category);
                    break;
                case HistoryFeature history:
                    foreach (var path in history.Per) Add(path, FieldUse.Category);
                    if (history.Of is not null) Add(history.Of, history.Kind is HistoryKind.Distinct or HistoryKind.New ? FieldUse.Category : FieldUse.Number);
                    break;
            }
        }
        foreach (var path in definition.Health.Slices) Add(path, FieldUse.Category);
        Fields = [.. fields];

        void Add(string path, FieldUse use)
        {
            if (_indices.TryGetValue(path, out int index))
            {
                fields[index] = (path, fields[index].Use | use);
                return;
            }
            _indices[path] = fields.Count;
            fields.Add((path, use));
        }
    }

    /// <summary>Where the id, the time, the label and the weight stand.</summary>
    public RecordOptions Options { get; }

    /// <summary>The fields, without repetition.</summary>
    public ImmutableArray<(string Path, FieldUse Use)> Fields { get; }

    /// <summary>The place of a path in <see cref="Fields"/>.</summary>
    /// <exception cref="KeyNotFoundException">No feature reads that path.</exception>
    public int IndexOf(string path) => _indices[path];

    /// <summary>Whether records read for one of the two can be used for the other.</summary>
    public bool ReadsAs(RecordSchema other) =>
        Fields.AsSpan().SequenceEqual(other.Fields.AsSpan())
        && Options == other.Options with { LabelValues = Options.LabelValues }
        && Options.LabelValues.Count == other.Options.LabelValues.Count
        && Options.LabelValues.All(value => other.Options.LabelValues.TryGetValue(value.Key, out int label) && label == value.Value);
}
