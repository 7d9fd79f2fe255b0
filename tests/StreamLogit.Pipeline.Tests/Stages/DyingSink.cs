using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Tests.Stages;

/// <summary>A sink that may die before and after each step.</summary>
internal sealed class DyingSink(IScoreSink inner, Death death) : IScoreSink
{
    public string Name => inner.Name;

    public void Start(long? mark)
    {
        inner.Start(mark);
        death.Step();
    }

    public void Write(RecordBatch records, ScoreBatch scores)
    {
        death.Step();
        inner.Write(records, scores);
        death.Step();
    }

    public long Flush()
    {
        death.Step();
        long mark = inner.Flush();
        death.Step();
        return mark;
    }

    public void Dispose() => inner.Dispose();
}
