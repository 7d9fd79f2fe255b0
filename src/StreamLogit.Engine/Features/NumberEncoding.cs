using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features;

/// <summary>A number: its scaled value at the first slot, or 1 at the second where it is missing.</summary>
internal sealed class NumberEncoding(NumberFeature options, int field, int firstSlot) : Feature(firstSlot)
{
    // A first outlier after a long constant would otherwise be divided by next to nothing.
    private const double LargestStandardised = 1e6;

    private RunningMoments _moments;

    public override int DenseSlots => options.DenseCoefficients;

    public override int MaximumEntries => 1;

    public override void Encode(RecordBatch records, int record, VectorBuilder vector)
    {
        ref var value = ref records.Fields(record)[field];
        if (!value.IsPresent)
        {
            vector.Add(FirstSlot + 1, 1);
            return;
        }
        vector.Add(FirstSlot, Scaled(value.Number));
        if (options.Scale == NumberScale.Standard) _moments.Add(value.Number);
    }

    public override string NameOf(int denseSlot) => denseSlot == FirstSlot ? options.Name : options.Name + " missing";

    public override void Save(BinaryWriter writer)
    {
        if (options.Scale != NumberScale.Standard) return;
        writer.Write(_moments.Count);
        writer.Write(_moments.Mean);
        writer.Write(_moments.SumOfSquares);
    }

    public override void Load(BinaryReader reader)
    {
        if (options.Scale != NumberScale.Standard) return;
        _moments.Count = reader.ReadInt64();
        _moments.Mean = reader.ReadDouble();
        _moments.SumOfSquares = reader.ReadDouble();
    }

    private double Scaled(double number) => options.Scale switch
    {
        NumberScale.None => number,
        NumberScale.Log1p => Math.CopySign(Elementary.Log1p(Math.Abs(number)), number),
        _ => Standardised(number),
    };

    /// <summary>0 until two events have shown a spread.</summary>
    private double Standardised(double number)
    {
        double variance = _moments.Variance;
        if (!(variance > 0)) return 0;
        return Math.Clamp((number - _moments.Mean) / Math.Sqrt(variance), -LargestStandardised, LargestStandardised);
    }
}
