#:package MimeKit
#:property RestorePackagesWithLockFile=false
#:property PublishAot=false

// Reads the messages of the corpus and writes a recording, in the order in which they were received: what a filter would know of each message, and whether
// it was filed as spam. The recording holds message text and stays out of the repository.
using System.Text;
using System.Text.Json;
using MimeKit;
using MimeKit.Utils;

if (args is not [var folder])
{
    Console.Error.WriteLine("usage: Mail.cs FOLDER-WITH-THE-CORPUS");
    return 2;
}

string[] hams = ["easy-ham-1", "easy-ham-2", "hard-ham-1"];
string[] spams = ["spam-1", "spam-2"];
var mails = hams.Select(name => (Name: name, Label: 0)).Concat(spams.Select(name => (Name: name, Label: 1)))
    .SelectMany(set => Directory.EnumerateFiles(Path.Combine(folder, set.Name), "*.txt").Select(file => Read(set.Name, file, set.Label)))
    .ToList();
foreach (string name in mails.Where(mail => mail.Received is null).Select(mail => mail.Id)) Console.Error.WriteLine($"left out, since nothing says when it was received: {name}");

using var output = Console.OpenStandardOutput();
foreach (var mail in mails.Where(mail => mail.Received is not null).OrderBy(mail => mail.Received).ThenBy(mail => mail.Id, StringComparer.Ordinal))
{
    JsonSerializer.Serialize(output, new
    {
        id = mail.Id,
        time = mail.Received!.Value.UtcDateTime.ToString("yyyy-MM-dd'T'HH:mm:ss'Z'", System.Globalization.CultureInfo.InvariantCulture),
        sender = mail.Sender,
        subject = mail.Subject,
        text = mail.Text,
        type = mail.Type,
        bytes = mail.Bytes,
        label = mail.Label,
    });
    output.WriteByte((byte)'\n');
}
return 0;

static Mail Read(string set, string file, int label)
{
    byte[] bytes = File.ReadAllBytes(file);
    string id = $"{set}/{Path.GetFileName(file)[..5]}";
    using var message = Open(bytes);
    // The first line of this kind was written last, by the machine that took the message in.
    string? received = message.Headers.FirstOrDefault(header => header.Id == HeaderId.Received)?.Value;
    DateTimeOffset? time = received is not null && DateUtils.TryParse(received[(received.LastIndexOf(';') + 1)..], out var date) ? date
        : message.Headers.Contains(HeaderId.Date) ? message.Date // some were filed without the lines of the machines on their way
        : null;
    string text = message.TextBody ?? message.HtmlBody ?? "";
    return new Mail(
        id, time, message.From.Mailboxes.FirstOrDefault()?.Domain.ToLowerInvariant() ?? "", Whole(message.Subject ?? ""), Whole(text[..Math.Min(text.Length, 4000)]),
        message.Body?.ContentType.MimeType.ToLowerInvariant() ?? "", bytes.Length, label);
}

static MimeMessage Open(byte[] bytes)
{
    // Each file begins with the line of a mailbox, which is no header.
    var stream = new MemoryStream(bytes);
    bool isMailbox = bytes.AsSpan().StartsWith("From "u8);
    return new MimeParser(stream, isMailbox ? MimeFormat.Mbox : MimeFormat.Entity).ParseMessage();
}

// Text that was cut, or was in no proper encoding, may hold halves of characters, which JSON has no way to write.
static string Whole(string text) => Encoding.UTF8.GetString(Encoding.UTF8.GetBytes(text));

internal sealed record Mail(string Id, DateTimeOffset? Received, string Sender, string Subject, string Text, string Type, int Bytes, int Label);
