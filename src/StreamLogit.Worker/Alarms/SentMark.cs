using System.Globalization;

namespace StreamLogit.Worker.Alarms;

/// <summary>
/// The number of the last change that was sent, in a file beside the state: a change that was committed but not sent when a worker died is sent by the next run.
/// </summary>
/// <param name="folder">The folder of the state.</param>
internal sealed class SentMark(string folder)
{
    private const string FileName = "alarms-sent";

    private readonly string _path = Path.Combine(folder, FileName);

    /// <summary>The number, or null where nothing was ever sent or nobody knows.</summary>
    public long? Read() =>
        File.Exists(_path) && long.TryParse(File.ReadAllText(_path), NumberStyles.None, CultureInfo.InvariantCulture, out long number) ? number : null;

    /// <summary>Puts another number in its place.</summary>
    public void Write(long number)
    {
        string next = _path + ".new";
        File.WriteAllText(next, number.ToString(CultureInfo.InvariantCulture));
        File.Move(next, _path, overwrite: true);
    }
}
