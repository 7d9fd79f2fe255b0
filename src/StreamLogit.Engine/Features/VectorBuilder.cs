using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

namespace StreamLogit.Engine.Features;

/// <summary>
/// The vector of one event while it is encoded, and what its reasons need: which feature each entry belongs to and
/// the sum of the slot's values over all events before this one. One builder is used for every event.
/// </summary>
internal sealed class VectorBuilder(SlotLedger ledger, int maximumEntries, int features)
{
    private readonly int[] _slots = new int[maximumEntries];
    private readonly double[] _values = new double[maximumEntries];
    private readonly int[] _features = new int[maximumEntries];
    private readonly double[] _sumsBefore = new double[maximumEntries];
    private readonly int[] _unseen = new int[features];
    private readonly double[] _figures = new double[features];
    private int _unseenCount;

    public int Count { get; private set; }

    /// <summary>Whether a category of this event met a slot that another value had taken before it.</summary>
    public bool HasCollision { get; private set; }

    /// <summary>The features with a category value whose slot no event used before.</summary>
    public ReadOnlySpan<int> UnseenFeatures => _unseen.AsSpan(0, _unseenCount);

    /// <summary>The feature whose entries are being added.</summary>
    public int Feature { get; set; }

    public EncodedVector Vector => new(_slots.AsSpan(0, Count), _values.AsSpan(0, Count));

    /// <summary>For each entry, the place of its feature in the definition.</summary>
    public ReadOnlySpan<int> Features => _features.AsSpan(0, Count);

    /// <summary>For each entry, the sum of its slot's values over the events before this one.</summary>
    public ReadOnlySpan<double> SumsBefore => _sumsBefore.AsSpan(0, Count);

    /// <summary>For each feature of the definition, the figure that a reason names; meaningless where it has no words.</summary>
    public ReadOnlySpan<double> Figures => _figures;

    /// <summary>Sets the figure of the feature whose entries are being added.</summary>
    public void SetFigure(double figure) => _figures[Feature] = figure;

    public void Clear()
    {
        Count = 0;
        HasCollision = false;
        _unseenCount = 0;
    }

    /// <summary>Adds an entry at a dense slot.</summary>
    public void Add(int slot, double value) => Append(slot, value, ledger.AddDense(slot, value));

    /// <summary>Adds an entry at a hashed slot.</summary>
    /// <returns>Whether the slot is used for the first time, so that it wants a name.</returns>
    public bool AddHashed(int slot, uint tag, double value = 1)
    {
        var use = ledger.AddHashed(slot, tag, Feature, value, out double sumBefore);
        Append(slot, value, sumBefore);
        if (use == SlotUse.Again) return false;
        HasCollision |= use == SlotUse.Collision;
        if (use != SlotUse.First) return false;
        // A text may have many new values and is one feature.
        if (_unseenCount == 0 || _unseen[_unseenCount - 1] != Feature) _unseen[_unseenCount++] = Feature;
        return true;
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private void Append(int slot, double value, double sumBefore)
    {
        int place = Count;
        _slots[place] = slot;

        // All of one length: the first has checked the place for the others.
        Unsafe.Add(ref MemoryMarshal.GetArrayDataReference(_values), place) = value;
        Unsafe.Add(ref MemoryMarshal.GetArrayDataReference(_features), place) = Feature;
        Unsafe.Add(ref MemoryMarshal.GetArrayDataReference(_sumsBefore), place) = sumBefore;
        Count = place + 1;
    }
}
