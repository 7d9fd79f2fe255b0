using System.Globalization;
using Spectre.Console;
using Spectre.Console.Rendering;

namespace StreamLogit.Worker.Output;

/// <summary>Shows how far long work has come, its rate and the time left, on standard error where that is a terminal.</summary>
internal static class WorkProgress
{
    private static readonly TimeSpan RedrawEvery = TimeSpan.FromMilliseconds(200);

    /// <summary>Runs work to its end and meanwhile shows what <paramref name="state"/> says.</summary>
    /// <param name="title">What is being done.</param>
    /// <param name="unit">What is counted, in the plural.</param>
    /// <param name="state">Gives the share done from 0 to 1, or null where nobody knows, and the count. Any thread may ask.</param>
    /// <param name="work">The work.</param>
    public static async Task<T> ShowAsync<T>(string title, string unit, Func<(double? Share, long Count)> state, Func<Task<T>> work)
    {
        if (!Terminal.Messages.IsInteractive) return await work();
        return await Terminal.Messages.Draw().Progress()
            .AutoClear(true)
            .Columns(new TaskDescriptionColumn(), new ProgressBarColumn(), new PercentageColumn(), new RateColumn(unit), new RemainingTimeColumn())
            .StartAsync(async context =>
            {
                var bar = context.AddTask(title, maxValue: 1);
                var running = Task.Run(work);
                while (!running.IsCompleted)
                {
                    var (share, count) = state();
                    bar.IsIndeterminate = share is null;
                    bar.Value = share ?? 0;
                    bar.State.Update<long>(RateColumn.CountKey, _ => count);
                    await Task.WhenAny(running, Task.Delay(RedrawEvery));
                }
                return await running;
            });
    }

    private sealed class RateColumn(string unit) : ProgressColumn
    {
        public const string CountKey = "count";

        public override IRenderable Render(RenderOptions options, ProgressTask task, TimeSpan deltaTime)
        {
            double seconds = task.ElapsedTime?.TotalSeconds ?? 0;
            long count = task.State.Get<long>(CountKey);
            double rate = seconds > 0 ? count / seconds : 0;
            return new Text(string.Create(CultureInfo.InvariantCulture, $"{count:N0} {unit}, {rate:N0}/s"));
        }
    }
}
