using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features;

/// <summary>Sine and cosine of the event's time over a period that starts at 1970-01-01T00:00:00Z.</summary>
internal sealed class TimeCycleEncoding(TimeCycleFeature options, int firstSlot) : Feature(firstSlot)
{
    public override int DenseSlots => options.DenseCoefficients;

    public override int MaximumEntries => 2;

    public override void Encode(RecordBatch records, int record, VectorBuilder vector)
    {
        long intoPeriod = records.Records[record].TimeMicroseconds % options.PeriodMicroseconds;
        if (intoPeriod < 0) intoPeriod += options.PeriodMicroseconds;
        Elementary.SinCosOfTurn((double)intoPeriod / options.PeriodMicroseconds, out double sine, out double cosine);
        vector.Add(FirstSlot, sine);
        vector.Add(FirstSlot + 1, cosine);
    }

    public override string NameOf(int denseSlot) => (denseSlot == FirstSlot ? "sine of " : "cosine of ") + options.Name;
}
