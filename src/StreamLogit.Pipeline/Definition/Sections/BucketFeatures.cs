using System.Collections.Immutable;
using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary>Features of the kind <c>bucket</c>.</summary>
internal static class BucketFeatures
{
    private const int MostBuckets = 100;

    public static BucketFeature? Read(ObjectReader section, string? field)
    {
        var edges = section.Optional("edges");
        var quantiles = section.Optional("quantiles");
        if (edges is null == quantiles is null)
        {
            section.Error("expected either \"edges\", the numbers at which it is cut, or \"quantiles\", into how many buckets");
            return null;
        }
        if (quantiles is not null)
            return quantiles.Whole(2, MostBuckets) is { } count && field is not null ? new BucketFeature(field) { Quantiles = count } : null;
        return ReadEdges(edges!) is { } read && field is not null ? new BucketFeature(field) { Edges = read } : null;
    }

    private static ImmutableArray<double>? ReadEdges(ValueReader value)
    {
        if (value.List("numbers", MostBuckets - 1) is not { } items) return null;
        var edges = ImmutableArray.CreateBuilder<double>();
        foreach (var item in items)
        {
            if (item.Number(NumberRange.Any) is not { } edge) continue;
            if (edges.Count > 0 && edge <= edges[^1]) item.Error($"expected a number above the edge before it, found {item.Value.Describe()}");
            else edges.Add(edge);
        }
        return edges.Count == items.Length ? edges.ToImmutable() : null;
    }
}
