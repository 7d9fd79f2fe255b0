using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features.Histories;

/// <summary>A history: its scaled figure at the first slot, or 1 at the second where there is none.</summary>
internal abstract class HistoryEncoding(HistoryFeature options, HistoryTable table, int firstSlot) : Feature(firstSlot)
{
    /// <summary>The share of an event that is still too much to be called nothing.</summary>
    protected const double SmallestWeight = 1.0 / (1ul << 63) / 2;

    private readonly Scaling _scaling = new(options.Scale == NumberScale.LogOdds ? NumberScale.None : options.Scale);

    protected HistoryFeature Options { get; } = options;

    public override int DenseSlots => 2;

    public override int MaximumEntries => 1;

    public override void Encode(RecordBatch records, int record, VectorBuilder vector)
    {
        double figure = table.Key == 0 ? double.NaN : Figure(table, records, record);
        vector.SetFigure(figure);
        if (double.IsFinite(figure)) vector.Add(FirstSlot, _scaling.Next(Shown(figure)));
        else vector.Add(FirstSlot + 1, 1);
    }

    public override string NameOf(int denseSlot) => denseSlot == FirstSlot ? Options.Name : Options.Name + " missing";

    public override void Save(BinaryWriter writer) => _scaling.Save(writer);

    public override void Load(BinaryReader reader) => _scaling.Load(reader);

    /// <summary>
    /// The figure of the key before the event: NaN where a field is missing, <see cref="ReasonWords.UnknownFigure"/> where the key has no past to take it from.
    /// The table is open for the event and has a key.
    /// </summary>
    protected abstract double Figure(HistoryTable table, RecordBatch records, int record);

    /// <summary>What of the figure the model sees, before it is scaled.</summary>
    protected virtual double Shown(double figure) => figure;
}
