using System.Text;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features;

/// <summary>A category, or several crossed: 1 at the slot to which the seeded hash of its value(s) leads.</summary>
internal sealed class CategoryEncoding : Feature
{
    private readonly CategoryFeature _options;
    private readonly int[] _fields;
    private readonly HashedSlots _hashed;
    private readonly CoefficientNames _names;
    private readonly ulong _seed;

    public CategoryEncoding(CategoryFeature options, int[] fields, HashedSlots hashed, CoefficientNames names)
        : base(firstSlot: 0)
    {
        _options = options;
        _fields = fields;
        _hashed = hashed;
        _names = names;
        _seed = hashed.SeedOf(options.Name);
    }

    public override int DenseSlots => 0;

    public override int MaximumEntries => 1;

    public override void Encode(RecordBatch records, int record, VectorBuilder vector)
    {
        ulong hash = _seed;
        var values = records.Fields(record);
        foreach (int field in _fields)
        {
            ref readonly var value = ref values[field];
            hash = HashedSlots.Combine(hash, value.IsPresent ? value.Hash : HashedSlots.MissingValue);
        }
        int slot = _hashed.SlotOf(hash);
        if (vector.AddHashed(slot, HashedSlots.TagOf(hash)) && _names.HasRoom)
            _names.Add(slot, NameOf(records, record));
    }

    public override string NameOf(int denseSlot) => throw new InvalidOperationException("a category has no dense slots");

    private string NameOf(RecordBatch records, int record)
    {
        var name = new StringBuilder(_options.Name).Append('=');
        for (int i = 0; i < _fields.Length; i++)
        {
            if (i > 0) name.Append(" & ");
            ref var value = ref records.Fields(record)[_fields[i]];
            if (value.IsPresent)
                name.Append(Encoding.UTF8.GetString(records.Bytes.Slice(value.TextStart, Math.Min(value.TextLength, CoefficientNames.MaximumTextBytes))));
            else
                name.Append("(missing)");
        }
        return name.ToString();
    }
}
