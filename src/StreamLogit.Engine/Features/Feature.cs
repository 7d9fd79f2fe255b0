using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features;

/// <summary>One feature of the definition at work. Its dense slots, if any, are next to each other from <see cref="FirstSlot"/>.</summary>
internal abstract class Feature(int firstSlot)
{
    protected int FirstSlot { get; } = firstSlot;

    /// <summary>How many dense slots it takes.</summary>
    public abstract int DenseSlots { get; }

    /// <summary>The most entries that it adds to a vector.</summary>
    public abstract int MaximumEntries { get; }

    /// <summary>Adds its entries for an event and, where it learns from events, learns from this one afterwards.</summary>
    public abstract void Encode(RecordBatch records, int record, VectorBuilder vector);

    /// <summary>The name of one of its dense slots.</summary>
    public abstract string NameOf(int denseSlot);

    /// <summary>Writes what it has learned from events; most features learn nothing.</summary>
    public virtual void Save(BinaryWriter writer) { }

    /// <summary>Reads what <see cref="Save"/> wrote.</summary>
    public virtual void Load(BinaryReader reader) { }
}
