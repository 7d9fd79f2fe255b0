using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features;

/// <summary>A number: its scaled value at the first slot, or 1 at the second where it is missing.</summary>
internal sealed class NumberEncoding(NumberFeature options, int field, int firstSlot) : Feature(firstSlot)
{
    private readonly Scaling _scaling = new(options.Scale);

    public override int DenseSlots => options.DenseCoefficients;

    public override int MaximumEntries => 1;

    public override void Encode(RecordBatch records, int record, VectorBuilder vector)
    {
        ref var value = ref records.Fields(record)[field];
        if (value.IsPresent) vector.Add(FirstSlot, _scaling.Next(value.Number));
        else vector.Add(FirstSlot + 1, 1);
    }

    public override string NameOf(int denseSlot) => denseSlot == FirstSlot ? options.Name : options.Name + " missing";

    public override void Save(BinaryWriter writer) => _scaling.Save(writer);

    public override void Load(BinaryReader reader) => _scaling.Load(reader);
}
