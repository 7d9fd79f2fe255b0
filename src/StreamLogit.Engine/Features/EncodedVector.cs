namespace StreamLogit.Engine.Features;

/// <summary>The sparse vector of an event: the slots that are not zero, in the order of the definition's features, and their values.</summary>
public readonly ref struct EncodedVector(ReadOnlySpan<int> slots, ReadOnlySpan<double> values)
{
    /// <summary>The coefficient slots. A slot may stand here twice when two categories collide.</summary>
    public ReadOnlySpan<int> Slots { get; } = slots;

    /// <summary>The value of each slot, as long as <see cref="Slots"/>.</summary>
    public ReadOnlySpan<double> Values { get; } = values;
}
