;;; Does in a real Emacs what a person would, and prints as JSON what that person would have seen.
;;; emacs -q --batch -l INIT -l drive_emacs.el: the job, as JSON, is in the variable JOB of the environment.
;; -*- lexical-binding: t -*-
(require 'json)
(require 'flymake)
(require 'cl-lib)

(defvar job (json-parse-string (getenv "JOB") :object-type 'alist))
(defun job (key) (alist-get key job))

(setq eglot-sync-connect 20 eglot-confirm-server-initiated-edits nil make-backup-files nil create-lockfiles nil
      ;; Code actions open a menu unless the last input was a key, and there is none in a batch.
      last-nonmenu-event ?x)

(defun until (what look)
  "Call LOOK again and again until it gives something; fail, naming WHAT, if it never does."
  (let ((end (+ (float-time) 20)) seen)
    (while (and (not (setq seen (funcall look))) (< (float-time) end))
      (accept-process-output nil 0.02))
    (or seen (error "%s: not within 20 s" what))))

(defun go (place)
  (goto-char (point-min))
  (forward-line (1- (alist-get 'line place)))
  (move-to-column (1- (alist-get 'column place))))

(defun findings ()
  "(LINE MESSAGE) of each finding in the buffer."
  (mapcar (lambda (finding)
            (list (line-number-at-pos (flymake-diagnostic-beg finding)) (flymake-diagnostic-text finding)))
          (flymake-diagnostics)))

(defun shows (message)
  "Whether one of the findings has MESSAGE."
  (cl-some (lambda (finding) (string-search message (nth 1 finding))) (findings)))

(find-file (job 'file))
(run-hooks 'post-command-hook)        ; the command loop, which a batch lacks, starts the server here
(until "the server" #'eglot-managed-p)
(flymake-start)
(until "all findings" (lambda () (= (length (flymake-diagnostics)) (job 'count))))
(defvar seen (list (cons 'mode (symbol-name major-mode))
                   (cons 'findings (vconcat (mapcar #'vconcat (findings))))))

(go (job 'name))
(let (text)
  (setq eldoc-display-functions (list (lambda (docs _) (setq text (mapconcat #'car docs "\n")))))
  (eldoc-print-current-symbol-info t)
  (push (cons 'hover (substring-no-properties
                      (until "the hover" (lambda () (and text (string-search (job 'family) text) text)))))
        seen))

(go (job 'finding))
(cl-letf (((symbol-function 'completing-read)
           (lambda (_ choices &rest _)
             (push (cons 'offered (vconcat (all-completions "" choices))) seen)
             (job 'remedy))))
  (eglot-code-actions (point) (point) nil t))
(eglot--signal-textDocument/didChange) ; its idle timer does not run in a batch
(flymake-start)
(until "the finding's end" (lambda () (not (shows (job 'message)))))

(set-buffer-modified-p nil)
(eglot-shutdown (eglot-current-server))
(princ (json-serialize seen))
