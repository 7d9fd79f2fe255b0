using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features;

/// <summary>Sine and cosine of a number over a period, or 1 at a third slot where it is missing.</summary>
internal sealed class NumberCycleEncoding(NumberCycleFeature options, int field, int firstSlot) : Feature(firstSlot)
{
    public override int DenseSlots => options.DenseCoefficients;

    public override int MaximumEntries => 2;

    public override void Encode(RecordBatch records, int record, VectorBuilder vector)
    {
        ref var value = ref records.Fields(record)[field];
        if (!value.IsPresent)
        {
            vector.Add(FirstSlot + 2, 1);
            return;
        }
        Elementary.SinCosOfTurn(TurnOf(value.Number), out double sine, out double cosine);
        vector.Add(FirstSlot, sine);
        vector.Add(FirstSlot + 1, cosine);
    }

    public override string NameOf(int denseSlot) => (denseSlot - FirstSlot) switch
    {
        0 => "sine of " + options.Name,
        1 => "cosine of " + options.Name,
        _ => options.Name + " missing",
    };

    /// <summary>The place in the period as a share of it, 0 to below 1.</summary>
    private double TurnOf(double number)
    {
        double turn = number % options.Period / options.Period; // the remainder is exact in IEEE arithmetic
        if (turn < 0) turn += 1;
        return turn < 1 ? turn : 0; // a tiny negative turn rounds up to 1
    }
}
