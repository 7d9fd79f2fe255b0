using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features;

/// <summary>A number in buckets: 1 at the slot of its bucket, or at the last slot where it is missing.</summary>
internal sealed class BucketEncoding(BucketFeature options, int field, int firstSlot) : Feature(firstSlot)
{
    private readonly double[] _edges = [.. options.Edges];
    private readonly QuantileSketch? _quantiles = options.Edges.IsEmpty ? new QuantileSketch() : null;

    public override int DenseSlots => Buckets + 1;

    public override int MaximumEntries => 1;

    private int Buckets => _quantiles is null ? _edges.Length + 1 : options.Quantiles;

    public override void Encode(RecordBatch records, int record, VectorBuilder vector)
    {
        ref var value = ref records.Fields(record)[field];
        vector.Add(FirstSlot + (value.IsPresent ? BucketOf(value.Number) : Buckets), 1);
        if (value.IsPresent) _quantiles?.Add(value.Number);
    }

    public override string NameOf(int denseSlot)
    {
        int bucket = denseSlot - FirstSlot;
        if (bucket == Buckets) return options.Field + " missing";
        if (_quantiles is not null) return FormattableString.Invariant($"{options.Field} in quantile {bucket + 1} of {Buckets}");
        if (bucket == 0) return FormattableString.Invariant($"{options.Field} below {_edges[0]}");
        if (bucket == _edges.Length) return FormattableString.Invariant($"{options.Field} from {_edges[^1]}");
        return FormattableString.Invariant($"{options.Field} from {_edges[bucket - 1]} to below {_edges[bucket]}");
    }

    public override void Save(BinaryWriter writer) => _quantiles?.Save(writer);

    public override void Load(BinaryReader reader) => _quantiles?.Load(reader);

    private int BucketOf(double number)
    {
        if (_quantiles is null) return SortedNumbers.NotAbove(_edges, number);
        return Math.Min(Buckets - 1, (int)(_quantiles.ShareBelow(number) * Buckets));
    }
}
