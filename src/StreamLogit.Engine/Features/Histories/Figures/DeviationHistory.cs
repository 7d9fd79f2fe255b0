using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features.Histories.Figures;

/// <summary><see cref="HistoryKind.Deviation"/>: 0 as long as the key's values have shown no spread.</summary>
internal sealed class DeviationHistory(HistoryFeature options, HistoryTable table, ValueMoments moments, int field, int firstSlot)
    : HistoryEncoding(options, table, firstSlot)
{
    // A first different value after many equal ones would otherwise be divided by next to nothing.
    private const double Largest = 10;

    protected override double Figure(HistoryTable table, RecordBatch records, int record)
    {
        ref var value = ref records.Fields(record)[field];
        if (!value.IsPresent) return double.NaN;
        var row = table.Row;
        if (moments.Weight(row) < SmallestWeight) return ReasonWords.UnknownFigure;
        double variance = moments.Variance(row);
        return variance > 0 ? Math.Clamp((value.Number - moments.Mean(row)) / Math.Sqrt(variance), -Largest, Largest) : 0;
    }
}
